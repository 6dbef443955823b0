#!/usr/bin/env bash
# Draws sample_plans/card-first-page.png from the card of the first sample (needs pdftoppm).
set -euo pipefail
cd "$(dirname "$0")/../.."
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
whirlcard card sample_plans/articulated-run-up --out "$work/card.pdf"
pdftoppm -r 80 -f 1 -l 1 -png -singlefile "$work/card.pdf" sample_plans/card-first-page

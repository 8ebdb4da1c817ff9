#!/bin/sh
for f in *.c; do echo "$f"; done

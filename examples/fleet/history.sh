#!/bin/sh
# Eight summers of five detectors: each line rehearses a calibration (simulated readings,
# the same for the same seed) and logs it. The log is the one that RUNGPROOF_LOG names; begin
# with a new one, for nothing is ever removed from a log.
set -e
cd "$(dirname "$0")"

# 2018
rungproof rehearse g1.toml --gain "0.05 %" --seed 20181 | rungproof log add --plan g1.toml --readings - --date 2018-06-04 --condition as-found
rungproof rehearse g2.toml --gain "0.02 %" --seed 20182 | rungproof log add --plan g2.toml --readings - --date 2018-06-05 --condition as-found
rungproof rehearse g3.toml --gain "0.1 %" --seed 20183 | rungproof log add --plan g3.toml --readings - --date 2018-06-06 --condition as-found
rungproof rehearse g4.toml --gain "-0.1 %" --seed 20184 | rungproof log add --plan g4.toml --readings - --date 2018-06-07 --condition as-found

# 2019
rungproof rehearse g1.toml --gain "0.05 %" --seed 20191 | rungproof log add --plan g1.toml --readings - --date 2019-06-03 --condition as-found
rungproof rehearse g2.toml --gain "0.145 %" --seed 20192 | rungproof log add --plan g2.toml --readings - --date 2019-06-04 --condition as-found
rungproof rehearse g3.toml --gain "0.34 %" --seed 20193 | rungproof log add --plan g3.toml --readings - --date 2019-06-05 --condition as-found
rungproof rehearse g4.toml --gain "-0.1 %" --seed 20194 | rungproof log add --plan g4.toml --readings - --date 2019-06-06 --condition as-found

# 2020
rungproof rehearse g1.toml --gain "0.05 %" --seed 20201 | rungproof log add --plan g1.toml --readings - --date 2020-06-08 --condition as-found
rungproof rehearse g2.toml --gain "0.27 %" --seed 20202 | rungproof log add --plan g2.toml --readings - --date 2020-06-09 --condition as-found
rungproof rehearse g3.toml --gain "0.61 %" --seed 20203 | rungproof log add --plan g3.toml --readings - --date 2020-06-10 --condition as-found
rungproof rehearse g4.toml --gain "-0.1 %" --seed 20204 | rungproof log add --plan g4.toml --readings - --date 2020-06-11 --condition as-found

# 2021
rungproof rehearse g1.toml --gain "0.05 %" --seed 20211 | rungproof log add --plan g1.toml --readings - --date 2021-06-07 --condition as-found
rungproof rehearse g2.toml --gain "0.395 %" --seed 20212 | rungproof log add --plan g2.toml --readings - --date 2021-06-08 --condition as-found
rungproof rehearse g3.toml --gain "0.86 %" --seed 20213 | rungproof log add --plan g3.toml --readings - --date 2021-06-09 --condition as-found
rungproof rehearse g3.toml --gain "-0.02 %" --seed 20216 | rungproof log add --plan g3.toml --readings - --date 2021-06-09 --condition as-left --note "gain adjusted"
rungproof rehearse g4.toml --gain "-0.1 %" --seed 20214 | rungproof log add --plan g4.toml --readings - --date 2021-06-10 --condition as-found

# 2022
rungproof rehearse g1.toml --gain "0.05 %" --seed 20221 | rungproof log add --plan g1.toml --readings - --date 2022-06-13 --condition as-found
rungproof rehearse g2.toml --gain "0.52 %" --seed 20222 | rungproof log add --plan g2.toml --readings - --date 2022-06-14 --condition as-found
rungproof rehearse g3.toml --gain "0.25 %" --seed 20223 | rungproof log add --plan g3.toml --readings - --date 2022-06-15 --condition as-found
rungproof rehearse g4.toml --gain "-0.1 %" --seed 20224 | rungproof log add --plan g4.toml --readings - --date 2022-06-16 --condition as-found
rungproof rehearse g5.toml --gain "0.18 %" --seed 151 | rungproof log add --plan g5.toml --readings - --date 2022-06-17 --condition as-found

# 2023
rungproof rehearse g1.toml --gain "0.05 %" --seed 20231 | rungproof log add --plan g1.toml --readings - --date 2023-06-12 --condition as-found
rungproof rehearse g2.toml --gain "0.645 %" --seed 20232 | rungproof log add --plan g2.toml --readings - --date 2023-06-13 --condition as-found
rungproof rehearse g3.toml --gain "0.5 %" --seed 20233 | rungproof log add --plan g3.toml --readings - --date 2023-06-14 --condition as-found
rungproof rehearse g4.toml --gain "-0.1 %" --range-gain "1 mV=3 %" --seed 20234 | rungproof log add --plan g4.toml --readings - --date 2023-06-15 --condition as-found
rungproof rehearse g4.toml --gain "-0.1 %" --seed 20237 | rungproof log add --plan g4.toml --readings - --date 2023-06-16 --condition as-left --note "a resistor of the 1 mV range replaced"
rungproof rehearse g5.toml --gain "0.18 %" --seed 252 | rungproof log add --plan g5.toml --readings - --date 2023-06-16 --condition as-found

# 2024
rungproof rehearse g1.toml --gain "0.05 %" --seed 20241 | rungproof log add --plan g1.toml --readings - --date 2024-06-10 --condition as-found
rungproof rehearse g2.toml --gain "0.77 %" --seed 20242 | rungproof log add --plan g2.toml --readings - --date 2024-06-11 --condition as-found
rungproof rehearse g3.toml --gain "0.77 %" --seed 20243 | rungproof log add --plan g3.toml --readings - --date 2024-06-12 --condition as-found
rungproof rehearse g3.toml --gain "-0.03 %" --seed 20246 | rungproof log add --plan g3.toml --readings - --date 2024-06-12 --condition as-left --note "gain adjusted"
rungproof rehearse g4.toml --gain "-0.1 %" --seed 20244 | rungproof log add --plan g4.toml --readings - --date 2024-06-13 --condition as-found
rungproof rehearse g5.toml --gain "0.18 %" --seed 353 | rungproof log add --plan g5.toml --readings - --date 2024-06-14 --condition as-found

# 2025
rungproof rehearse g1.toml --gain "0.05 %" --seed 20251 | rungproof log add --plan g1.toml --readings - --date 2025-06-16 --condition as-found
rungproof rehearse g2.toml --gain "0.895 %" --seed 20252 | rungproof log add --plan g2.toml --readings - --date 2025-06-17 --condition as-found
rungproof rehearse g3.toml --gain "0.22 %" --seed 20253 | rungproof log add --plan g3.toml --readings - --date 2025-06-18 --condition as-found
rungproof rehearse g4.toml --gain "-0.1 %" --seed 20254 | rungproof log add --plan g4.toml --readings - --date 2025-06-19 --condition as-found
rungproof rehearse g5.toml --gain "0.18 %" --seed 454 | rungproof log add --plan g5.toml --readings - --date 2025-06-20 --condition as-found

"""Two waters in equilibrium with calcite, mixed: the degree of saturation of the mixture.

    pip install mpmath
    python blend.py

Ideal activities, 25 °C; the constants are the ones written in `tests/problems/waters/`.
Each water is 2 [Ca] + [H] = [HCO3] + 2 [CO3] + [OH] with [Ca] [CO3] = Ksp at a pressure of
CO2; a mixture has the means of the totals of Ca and of carbonate. Nothing of the program is
used. It prints the totals that the files state and the pH and index that they expect."""

import mpmath as mp

mp.mp.dps = 40
K1, K2, KH = mp.mpf(10) ** -mp.mpf("6.35"), mp.mpf(10) ** -mp.mpf("10.33"), mp.mpf(10) ** -mp.mpf("1.47")
KSP, KW = mp.mpf(10) ** -mp.mpf("8.48"), mp.mpf(10) ** -mp.mpf("14.00")


def carbonate(h, total):
    alpha = 1 / (1 + h / K2 + h * h / (K1 * K2))
    return total * h * h * alpha / (K1 * K2), total * h * alpha / K2, total * alpha


def saturated(pressure):
    def charge(ph):
        h = mp.mpf(10) ** -ph
        co2 = KH * pressure
        hco3 = K1 * co2 / h
        co3 = K2 * hco3 / h
        return 2 * KSP / co3 + h - hco3 - 2 * co3 - KW / h

    ph = mp.findroot(charge, (mp.mpf(6), mp.mpf(9)), solver="anderson")
    h = mp.mpf(10) ** -ph
    co2 = KH * pressure
    hco3 = K1 * co2 / h
    co3 = K2 * hco3 / h
    return ph, KSP / co3, co2 + hco3 + co3


def mixed(calcium, total):
    def charge(ph):
        h = mp.mpf(10) ** -ph
        _, hco3, co3 = carbonate(h, total)
        return 2 * calcium + h - hco3 - 2 * co3 - KW / h

    ph = mp.findroot(charge, (mp.mpf(5), mp.mpf(10)), solver="anderson")
    _, _, co3 = carbonate(mp.mpf(10) ** -ph, total)
    return ph, mp.log10(calcium * co3 / KSP)


if __name__ == "__main__":
    waters = [saturated(mp.mpf("0.0004")), saturated(mp.mpf("0.05"))]
    for ph, calcium, total in waters:
        print("water", *(mp.nstr(x, 15) for x in (ph, calcium, total)))
    for share in ("0.1", "0.5", "0.9"):
        share = mp.mpf(share)
        calcium, total = (share * a + (1 - share) * b for a, b in zip(waters[0][1:], waters[1][1:]))
        print(mp.nstr(share, 3), *(mp.nstr(x, 12) for x in mixed(calcium, total)))

"""Type numbers of twenty families of the trade, made up in their pattern, for lists longer than the shipped catalog."""

import random
from collections.abc import Callable

_E24 = (10, 11, 12, 13, 15, 16, 18, 20, 22, 24, 27, 30, 33, 36, 39, 43, 47, 51, 56, 62, 68, 75, 82, 91)
_SUFFIXES = ("", "", "", "", "A", "B", "-T", "G", "-TR", "L", "-AP", "T1", "/54")


def _family(source: random.Random) -> list[Callable[[], str]]:
    choice, number = source.choice, source.randrange

    def volts() -> str:
        value = choice(_E24)
        return choice((f"{value // 10}V{value % 10}", f"{value}"))

    return [
        lambda: f"1N{number(100, 9999)}", lambda: f"2N{number(100, 9999)}", lambda: f"2S{choice('ABCDK')}{number(10, 5999)}",
        lambda: f"B{choice('CDFU')}{choice('XYTW')}{number(10, 999)}", lambda: f"B{choice('CDFU')}{number(100, 999)}",
        lambda: f"{choice(('MJE', 'ST', 'E', 'KSE', 'PHE', 'TS'))}130{number(1, 10):02d}",
        lambda: f"{choice(('FR', 'UF', 'HER', 'SF', 'RL', 'MUR'))}{number(10, 999)}",
        lambda: f"{choice(('SB', 'SR', 'SS', 'MBR', 'STPS'))}{number(10, 999)}{choice(('', '0', 'CT'))}",
        lambda: f"BZ{choice('XTV')}{choice((55, 79, 84, 85))}{choice('BC')}{volts()}",
        lambda: f"{choice(('P6KE', '1.5KE', 'SMAJ', 'SMBJ'))}{choice(_E24)}{choice(('', '0'))}{choice(('A', 'CA', ''))}",
        lambda: f"{choice(('KBP', 'KBL', 'GBU', 'DF', 'MB', 'DB'))}{number(1, 40):02d}{number(1, 11)}",
        lambda: f"{number(1, 40)}N{number(2, 99)}", lambda: f"IRF{choice(('', 'B', 'P', 'R'))}{number(100, 9999)}",
        lambda: f"{choice(('PC', 'LTV-', 'EL', 'TLP', 'K'))}{number(100, 9999)}{choice(('', 'A', 'B', 'C'))}",
        lambda: f"{choice(('L', 'LM', 'MC', 'KA', 'UA'))}7{choice('89')}{choice(('', 'L', 'M'))}{number(3, 25):02d}",
        lambda: f"{choice(('UC', 'TNY', 'VIPer', 'FSD', 'OB', 'NCP', 'LNK'))}{number(10, 9999)}",
        lambda: f"{choice(('CFR', 'MFR', 'RC', 'FRN'))}{choice((25, 50, 100))}-{choice(_E24)}{choice('RKM')}{number(9)}",
        lambda: f"{choice(('ECA', 'UHE', 'EEU', 'ZLH'))}{number(0, 3)}{choice('ACEHJ')}{choice(_E24)}{number(0, 9)}M",
        lambda: f"{choice('FT')}{choice(('0.5', '1', '1.6', '2', '2.5', '3.15', '4'))}A{choice('LH')}250V{number(1, 99)}",
        lambda: f"{choice(('NTC', 'MF72-', 'SCK'))}{number(1, 50)}D-{number(5, 25)}",
        lambda: f"{choice(('05', '07', '10', '14', '20'))}D{choice(_E24)}{number(0, 3)}{choice('KLM')}",
    ]


def type_numbers(count: int, seed: int) -> list[str]:
    """``count`` different type numbers with ordering suffixes."""
    source = random.Random(seed)
    families = _family(source)
    found: dict[str, None] = {}
    while len(found) < count:
        name = source.choice(families)() + source.choice(_SUFFIXES)
        if len(found) > count // 3:
            name += source.choice(("", f"-{source.randrange(1, 999)}", f"{source.choice('ABCDEFGH')}{source.randrange(9)}"))
        found[name] = None
    return list(found)

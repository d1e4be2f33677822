"""Fuse files for the tests, and both sums by a road of their own: bit by bit, byte by byte."""

STX, ETX = b"\x02", b"\x03"


def sum_of_bytes(data):
    total = 0
    for byte in data:
        total = (total + (byte % 128)) % 65536
    return f"{total:04X}".encode()


def sum_of_fuses(states):
    total = 0
    for first in range(0, len(states), 8):
        for bit, state in enumerate(states[first : first + 8]):
            total += state * 2**bit
    return total % 65536


def transmission(body):
    """STX, the body, ETX and the right sum."""
    data = STX + body + ETX
    return data + sum_of_bytes(data)


# Written by hand. Fuse checksum: fuses 0 to 7 are 1,0,1,1,0,0,1,1, which is CD with fuse 0 in bit
# 0; fuses 8 to 11 are 1,1,0,0, which is 03; CD + 03 = D0. Transmission sum added up with awk.
GOLDEN = (
    b"\x02Grain dryer*\r\n"
    b"N rev A*\r\n"
    b"QP6*\r\n"
    b"QF12*\r\n"
    b"QV1*\r\n"
    b"G0*\r\n"
    b"F0*\r\n"
    b"X0*\r\n"
    b"L00 101100*\r\n"
    b"L06 111100*\r\n"
    b"C00D0*\r\n"
    b"V0001 01HLXN*\r\n"
    b"\x031550"
)
GOLDEN_STATES = "101100111100"

# Sample file in JEDEC Standard No. 3-A: a memory decoder with 20 pins and 8 vectors. Of the
# vectors the first and the last are the sample's; those between are of the same make.
SAMPLE = (
    b"memory decoder*\r\nQP20*\r\nQF448*\r\nQV8*\r\nF0*\r\nX0*\r\n"
    b"L0000 1111101111111111111111111111*\r\n"
    b"L0028 1011111111111111111111111111*\r\n"
    b"L0056 1110111111111111111111111111*\r\n"
    b"L0112 0101011101111011111111111111*\r\n"
    b"L0224 0101011110111011111111111111*\r\n"
    b"L0336 0101011101110111111111111111*\r\n"
    b"C124E*\r\n"
    b"V0001 000000XXXNXXXHHHLXXN*\r\n"
    b"V0002 010000XXXNXXXHHHLXXN*\r\n"
    b"V0003 100000XXXNXXXHHLHXXN*\r\n"
    b"V0004 110000XXXNXXXHHLHXXN*\r\n"
    b"V0005 111000XXXNXXXHLHHXXN*\r\n"
    b"V0006 111010XXXNXXXLHHHXXN*\r\n"
    b"V0007 111100XXXNXXXLHHHXXN*\r\n"
    b"V0008 111110XXXNXXXHHHHXXN*\r\n"
)

#define PAR8_DATA       (*(volatile unsigned char *)0x8000)
#define MV_PER_COUNT    20      /* 2 x 2.56 V / 256 */

unsigned int rail_mv;

void par8_interrupt(void)
{
    unsigned char c = PAR8_DATA;

    rail_mv = (unsigned int)c * MV_PER_COUNT * 3;
}

extern unsigned char inport(unsigned port);

unsigned level_mv(void)
{
    unsigned char word = ~inport(0x31);

    return word * 80u;
}

/* registers of the three bridge inputs; the upper four bits read as zero */
#define BRIDGE_A    (*(volatile uint16_t *)0x40012040u)
#define BRIDGE_B    (*(volatile uint16_t *)0x40012042u)
#define BRIDGE_C    (*(volatile uint16_t *)0x40012044u)

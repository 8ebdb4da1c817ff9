#define BOARD_POND      1
#define BOARD_TUNNEL    2
#define BOARD_HATCHERY  3

#if BOARD == BOARD_POND
# define VREF_MV    5000UL
# define ADC_FS     1023UL
# define DIV_TOP    100UL
# define DIV_BOTTOM 10UL
#elif BOARD == BOARD_TUNNEL
# define VREF_MV    3300UL
# define ADC_FS     4096UL
# define DIV_TOP    47UL
# define DIV_BOTTOM 10UL
#elif BOARD == BOARD_HATCHERY
# define VREF_MV    2500UL
# define ADC_FS     1024UL
# define DIV_TOP    50UL
# define DIV_BOTTOM 10UL
#else
# error "which board?"
#endif
#define SUPPLY_CH   4

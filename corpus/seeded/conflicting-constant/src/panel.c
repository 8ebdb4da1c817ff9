#include "panel.h"

void panel_put(int row, unsigned value);

void panel_about(void)
{
    panel_put(ROWS - 1, AREF_MV);
}

#include "made_sea.h"
int main(void)
{
    return 0;
}

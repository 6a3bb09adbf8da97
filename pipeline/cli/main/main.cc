#include "cli/cli.h"

int main(int argc, char** argv) { return phraseweld::Main(argc, argv); }

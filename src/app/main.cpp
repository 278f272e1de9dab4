#include "cli/run.hpp"

int main(int argc, char** argv) { return scourbook::cli::run(argc, argv); }

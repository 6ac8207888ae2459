#include "server/app/run.h"

int main(int argc, char** argv) {
  return bandwright::run(argc, argv);
}

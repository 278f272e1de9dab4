// Writes the demo: the invented river Tarrowen with the stations Millmark (TAR-1) and Lowbridge (TAR-2), ten
// water years long. The seeds are fixed and the arithmetic is reproducible, so every run on every machine
// writes the same.
//
//   scenario_generate FIELD_FOLDER TRUTH_FOLDER
//
// FIELD_FOLDER receives what an office would hold; TRUTH_FOLDER what the river really did, for
// scenario_compare only.

#include <zlib.h>

#include <cstdio>
#include <exception>
#include <filesystem>
#include <fstream>
#include <stdexcept>

#include "field.hpp"

namespace {

using scenario::TextFile;

void write_plain(const std::filesystem::path& path, const std::string& text) {
  std::ofstream out(path, std::ios::binary);
  out.write(text.data(), static_cast<std::streamsize>(text.size()));
  out.close();
  if (!out) throw std::runtime_error("cannot write " + path.string());
}

void write_packed(const std::filesystem::path& path, const std::string& text) {
  const gzFile out = gzopen(path.c_str(), "wb6");
  if (out == nullptr) throw std::runtime_error("cannot write " + path.string());
  const int written = gzwrite(out, text.data(), static_cast<unsigned>(text.size()));
  if (gzclose(out) != Z_OK || written != static_cast<int>(text.size())) {
    throw std::runtime_error("cannot write " + path.string());
  }
}

void write_all(const std::filesystem::path& folder, const std::vector<TextFile>& files) {
  std::filesystem::create_directories(folder);
  for (const TextFile& file : files) {
    const auto path = folder / file.name;
    if (path.extension() == ".gz") {
      write_packed(path, file.text);
    } else {
      write_plain(path, file.text);
    }
    std::printf("%10zu bytes  %s\n", static_cast<std::size_t>(std::filesystem::file_size(path)),
                path.c_str());
  }
}

}  // namespace

int main(int argc, char** argv) {
  if (argc != 3) {
    std::fputs("usage: scenario_generate FIELD_FOLDER TRUTH_FOLDER\n", stderr);
    return 2;
  }
  try {
    const scenario::Site millmark = scenario::millmark();
    const scenario::Site lowbridge = scenario::lowbridge(millmark);
    write_all(argv[1], scenario::field_files(millmark, lowbridge));
    write_all(argv[2], scenario::truth_files(millmark, lowbridge));
  } catch (const std::exception& failure) {
    std::fprintf(stderr, "%s\n", failure.what());
    return 1;
  }
  return 0;
}

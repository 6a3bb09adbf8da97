#ifndef PHRASEWELD_TESTS_SUPPORT_TEMP_FOLDER_H_
#define PHRASEWELD_TESTS_SUPPORT_TEMP_FOLDER_H_

#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <sstream>
#include <stdexcept>
#include <string>
#include <string_view>

namespace phraseweld {

// A fresh folder, removed with all that is in it in the end.
class TempFolder {
 public:
  TempFolder() {
    std::string pattern = (std::filesystem::temp_directory_path() / "phraseweld-XXXXXX").string();
    if (mkdtemp(pattern.data()) == nullptr) throw std::runtime_error("no temporary folder");
    path_ = pattern;
  }
  ~TempFolder() {
    std::error_code ignored;
    std::filesystem::remove_all(path_, ignored);
  }
  TempFolder(const TempFolder&) = delete;
  TempFolder& operator=(const TempFolder&) = delete;

  const std::string& path() const { return path_; }
  std::string Path(const std::string& name) const { return path_ + "/" + name; }

  // Writes a file, with the folders above it; returns its path.
  std::string Put(const std::string& name, std::string_view bytes) const {
    const std::string path = Path(name);
    std::filesystem::create_directories(std::filesystem::path(path).parent_path());
    std::ofstream(path, std::ios::binary) << bytes;
    return path;
  }

  std::string Get(const std::string& name) const {
    std::ifstream file(Path(name), std::ios::binary);
    if (!file) throw std::runtime_error("no file " + Path(name));
    std::ostringstream bytes;
    bytes << file.rdbuf();
    return bytes.str();
  }

  bool Has(const std::string& name) const { return std::filesystem::exists(Path(name)); }

 private:
  std::string path_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_TESTS_SUPPORT_TEMP_FOLDER_H_

#include <algorithm>
#include <filesystem>
#include <set>
#include <utility>

#include "absl/strings/str_cat.h"
#include "absl/strings/str_join.h"
#include "base/status.h"
#include "files/file_system.h"
#include "files/pattern.h"
#include "read/corpus.h"

namespace phraseweld {
namespace {

constexpr char kStandardInput[] = "-";

// The path from the root, without "." and "..", so that two spellings of one path are equal.
std::filesystem::path FullPath(const std::string& path) {
  return std::filesystem::absolute(path).lexically_normal();
}

// What `pattern` stands for, files or not. A path whose own name looks like a pattern is found too.
absl::StatusOr<std::vector<std::string>> Expand(const std::string& pattern) {
  std::vector<std::string> paths;
  if (IsPattern(pattern)) {
    PW_ASSIGN_OR_RETURN(paths, ExpandPattern(pattern));
  }
  if (paths.empty()) {
    PW_ASSIGN_OR_RETURN(const FileInfo info, FileSystem::Posix().Stat(pattern));
    if (info.exists) paths.push_back(pattern);
  }
  return paths;
}

class Resolver {
 public:
  void Add(const std::string& pattern) {
    if (pattern == kStandardInput) {
      AddFile(pattern, pattern);
      return;
    }
    const absl::StatusOr<std::vector<std::string>> paths = Expand(pattern);
    if (!paths.ok()) {
      faults_.push_back(std::string(paths.status().message()));
      return;
    }
    if (paths->empty()) {
      faults_.push_back(absl::StrCat(
          IsPattern(pattern) ? "no file matches " : "there is no file ", pattern, " (seen from ",
          std::filesystem::current_path().string(), "); mend the path or take it out"));
    }
    for (const std::string& path : *paths) AddPath(path);
  }

  absl::StatusOr<std::vector<InputFile>> Finish() {
    if (inputs_.empty() && faults_.empty()) faults_.push_back("no file is named");
    NameBelowCommonFolder();
    CheckNames();
    if (!faults_.empty()) {
      return absl::InvalidArgumentError(
          absl::StrCat("corpus.files: ", absl::StrJoin(faults_, "\ncorpus.files: ")));
    }
    return std::move(inputs_);
  }

 private:
  void AddPath(const std::string& path) {
    const absl::StatusOr<FileInfo> info = FileSystem::Posix().Stat(path);
    if (!info.ok()) {
      faults_.push_back(std::string(info.status().message()));
    } else if (info->is_directory) {
      faults_.push_back(absl::StrCat(path, " is a folder; name its files, as ",
                                     path.ends_with('/') ? path : path + "/", "*"));
    } else {
      AddFile(path, FullPath(path).string());
    }
  }

  void AddFile(const std::string& path, const std::string& identity) {
    if (seen_.insert(identity).second) {
      inputs_.push_back({.path = path, .relative = ""});
    } else if (path == kStandardInput) {
      faults_.push_back("standard input (-) is named twice; it can be read once only");
    } else {
      faults_.push_back(absl::StrCat(path, " is named twice; take one out"));
    }
  }

  void NameBelowCommonFolder() {
    std::vector<std::filesystem::path> full_paths;
    for (const InputFile& input : inputs_) full_paths.push_back(FullPath(input.path));
    std::filesystem::path common;
    bool first = true;
    for (size_t i = 0; i < inputs_.size(); ++i) {
      if (inputs_[i].path == kStandardInput) continue;
      const std::filesystem::path folder = full_paths[i].parent_path();
      if (first) {
        common = folder;
        first = false;
        continue;
      }
      std::filesystem::path shared;
      for (auto a = common.begin(), b = folder.begin();
           a != common.end() && b != folder.end() && *a == *b; ++a, ++b) {
        shared /= *a;
      }
      common = shared;
    }
    for (size_t i = 0; i < inputs_.size(); ++i) {
      std::string& relative = inputs_[i].relative;
      if (inputs_[i].path == kStandardInput) {
        relative = "stdin";
        continue;
      }
      relative = full_paths[i].lexically_relative(common).generic_string();
      for (const std::string suffix : {".zst", ".gz"}) {
        if (relative.ends_with(suffix)) {
          relative.resize(relative.size() - suffix.size());
          break;
        }
      }
    }
  }

  // The rewritten files lie under these names: no two may be one, and none may be another's folder.
  void CheckNames() {
    std::vector<const InputFile*> by_name;
    for (const InputFile& input : inputs_) by_name.push_back(&input);
    std::stable_sort(by_name.begin(), by_name.end(), [](const InputFile* a, const InputFile* b) {
      return a->relative < b->relative;
    });
    for (size_t i = 0; i + 1 < by_name.size(); ++i) {
      const InputFile& input = *by_name[i];
      if (by_name[i + 1]->relative == input.relative) {
        faults_.push_back(absl::StrCat(input.path, " and ", by_name[i + 1]->path,
                                       " would both be rewritten to corpus/", input.relative,
                                       "; rename one"));
        continue;
      }
      const std::string below = input.relative + "/";
      const auto inside = std::lower_bound(
          by_name.begin(), by_name.end(), below,
          [](const InputFile* other, const std::string& name) { return other->relative < name; });
      if (inside != by_name.end() && (*inside)->relative.starts_with(below)) {
        faults_.push_back(absl::StrCat(input.path, " would be rewritten to corpus/", input.relative,
                                       ", which is the folder of ", (*inside)->path,
                                       "; rename one"));
      }
    }
  }

  std::vector<InputFile> inputs_;
  std::set<std::string> seen_;
  std::vector<std::string> faults_;
};

}  // namespace

absl::StatusOr<std::vector<InputFile>> ResolveInputs(const std::vector<std::string>& patterns) {
  Resolver resolver;
  for (const std::string& pattern : patterns) resolver.Add(pattern);
  return resolver.Finish();
}

}  // namespace phraseweld

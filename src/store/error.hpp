#pragma once
#include <stdexcept>
#include <string>

namespace scourbook::store {

/// A refused or damaged book. The one exception type of the store; caught in cli and view only.
class StoreError : public std::runtime_error {
 public:
  enum class Kind {
    refused,     ///< not allowed, or asks for what does not exist: exit status 1
    not_a_book,  ///< the file is no Scourbook book, or cannot be opened: exit status 1
    busy,        ///< another program is writing: exit status 1
    io,          ///< the file system failed: exit status 1
    damaged,     ///< content that contradicts itself: exit status 3
    newer        ///< written by a newer program: exit status 3
  };
  StoreError(Kind kind, const std::string& message) : std::runtime_error(message), kind_(kind) {}
  [[nodiscard]] Kind kind() const { return kind_; }

 private:
  Kind kind_;
};

}  // namespace scourbook::store

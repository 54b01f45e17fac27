// Reading one TOML table key by key, so that every mistake is answered with its line and the nearest known key.
#pragma once

#include <toml++/toml.h>

#include <optional>
#include <string>
#include <vector>

#include "core/base/error.h"

namespace runband {

/// A table of a case file while it is read. Every key asked for becomes a known key; finish() refuses the others.
class TomlSection {
 public:
  /// @param table may be null: then every key is absent. @param origin file name for messages. @param path "" at the
  /// top.
  TomlSection(const toml::table* table, std::string origin, std::string path);

  bool present() const { return table_ != nullptr; }
  bool has(const std::string& key) const { return table_ != nullptr && table_->contains(key); }
  const toml::node* node(const std::string& key);

  std::optional<double> number(const std::string& key);
  /// Integers and floats alike; throws out_of_range with the range in words unless low <= value <= high.
  std::optional<double> number_in(const std::string& key, double low, double high, const std::string& unit);
  std::optional<long> integer_in(const std::string& key, long low, long high);
  std::optional<std::string> text(const std::string& key);
  std::optional<std::string> choice(const std::string& key, const std::vector<std::string>& choices);
  std::optional<bool> boolean(const std::string& key);
  /// A number, an array of numbers, or { from, to, step }.
  std::optional<std::vector<double>> numbers(const std::string& key);
  TomlSection section(const std::string& key);
  /// The tables of an array of tables.
  std::vector<TomlSection> sections(const std::string& key);

  /// "file:12: [track] gauge_mm"
  std::string where(const std::string& key) const;
  std::string full_name(const std::string& key) const { return path_.empty() ? key : path_ + "." + key; }
  const toml::table* table() const { return table_; }
  /// @throws InputError (unknown_key) for the first key that nobody asked for.
  void finish() const;

 private:
  [[noreturn]] void wrong_type(const std::string& key, const std::string& wanted) const;

  const toml::table* table_;
  std::string origin_;
  std::string path_;
  std::vector<std::string> known_;
};

/// Parses TOML text. @throws InputError (bad_syntax) "origin:line: ...".
toml::table parse_toml(const std::string& text, const std::string& origin);

}  // namespace runband

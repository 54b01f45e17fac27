// Every failure of the program: a stable code, one message in three parts (where, what, what to do), and an exit
// status.
#pragma once

#include <stdexcept>
#include <string>

namespace runband {

/// 1xx what the user wrote, 2xx files, 3xx numerics, 4xx plugins, 5xx stopped on request. Numbers are never reused.
enum class ErrorCode : int {
  out_of_range = 101,
  unknown_key = 102,
  wrong_type = 103,
  missing_key = 104,
  bad_syntax = 105,
  bad_option = 106,
  conflicting_keys = 107,
  unknown_name = 108,
  profile_not_a_number = 110,
  profile_too_few_points = 111,
  profile_crosses_itself = 112,
  profile_repeated_points = 113,
  profile_spike = 114,
  profile_gap = 115,
  profile_wrong_unit = 116,
  profile_upside_down = 117,
  profile_mirrored = 118,
  profile_not_covering = 119,
  profile_not_continuous = 120,
  profile_bad_row = 121,
  no_contact = 130,
  file_unreadable = 201,
  file_unwritable = 202,
  file_wrong_kind = 203,
  drawing_unavailable = 204,
  not_converged = 301,
  no_solution = 302,
  plugin_incompatible = 401,
  plugin_failed = 402,
  plugin_missing = 403,
  cancelled = 501,
};

/// Base of everything this project throws. what() is "where: what happened." followed by the cure on a second line.
class Error : public std::runtime_error {
 public:
  Error(ErrorCode code, std::string message, std::string cure);

  ErrorCode code() const { return code_; }
  const std::string& message() const { return message_; }  ///< where and what, one sentence
  const std::string& cure() const { return cure_; }        ///< what to do; may be empty
  /// 2 what the user wrote, 3 a file, 4 numerics, 5 a plugin, 130 stopped on request.
  int exit_status() const;

 private:
  ErrorCode code_;
  std::string message_;
  std::string cure_;
};

/// What the user wrote (1xx).
struct InputError : Error {
  using Error::Error;
};
/// A file cannot be read or written (2xx).
struct FileError : Error {
  using Error::Error;
};
/// A plugin is missing, incompatible or failed (4xx).
struct PluginError : Error {
  using Error::Error;
};
/// The caller asked to stop (501).
struct Cancelled : Error {
  Cancelled();
};
/// An iteration ended without an answer (3xx). Carries how far it came.
struct NotConverged : Error {
  NotConverged(std::string what_failed, int iterations, double residual, std::string cure);
  int iterations;
  double residual;
};

/// The range error used everywhere: "<where>: <name> is <value> <unit>, must be <range>."
InputError out_of_range(const std::string& where, const std::string& name, double value, const std::string& unit,
                        const std::string& range);

/// Throws out_of_range unless value is finite and > 0.
void require_positive(const std::string& where, const std::string& name, double value, const std::string& unit);

}  // namespace runband

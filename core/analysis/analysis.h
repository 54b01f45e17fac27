// What an analysis is: it says what it needs, gives and takes, and returns named values with units. It never draws.
#pragma once

#include <map>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "core/analysis/result.h"
#include "core/base/material.h"
#include "core/base/progress.h"
#include "core/case/case.h"
#include "core/locate/locate.h"
#include "core/patch/patch.h"

namespace runband {

/// patch: once for each loaded contact. wheelset: once for the wheelset as a whole.
enum class Scope { patch, wheelset };

struct Parameter {
  std::string key;  ///< snake_case; "[analyses.ID] key" in a case, "--set ID.key=value" on the command line
  std::string title;
  std::string unit;                  ///< "1" for a pure number, empty for texts and switches
  ParameterValue value;              ///< the default; its type is the parameter's type
  std::optional<double> min, max;    ///< both ends belong to the range
  std::vector<std::string> choices;  ///< of a text
  std::string help;                  ///< a sentence
  std::string reference;             ///< source of the default; "(memory)" where it was not looked up
};

struct Description {
  std::string id;  ///< snake_case, unique
  std::string title;
  std::string summary;  ///< a sentence
  Scope scope = Scope::patch;
  std::vector<std::string> needs;  ///< names that other analyses of the same scope give
  std::vector<std::string> gives;  ///< names of quantities, fields, curves, marks or volumes
  std::vector<Parameter> parameters;
  std::vector<std::string> references;
};

/// Parameters as asked, defaults filled in, checked.
class Parameters {
 public:
  explicit Parameters(std::map<std::string, ParameterValue> values) : values_(std::move(values)) {}
  double number(const std::string& key) const { return std::get<double>(values_.at(key)); }
  bool flag(const std::string& key) const { return std::get<bool>(values_.at(key)); }
  const std::string& text(const std::string& key) const { return std::get<std::string>(values_.at(key)); }

 private:
  std::map<std::string, ParameterValue> values_;
};

/// Results of the analyses that ran before, by the names they gave.
class Inputs {
 public:
  void add(const AnalysisResult& result) { results_.push_back(&result); }
  /// @throws Error (plugin_failed) naming what is missing.
  const Field& field(const std::string& name) const;
  double quantity(const std::string& name) const;
  const Curve& curve(const std::string& name) const;
  bool has(const std::string& name) const;

 private:
  std::vector<const AnalysisResult*> results_;
};

/// How the wheelset moves.
struct Motion {
  double speed_m_s = 20;
  double yaw_rad = 0;
  double curve_radius_m = 0;  ///< 0 straight, + turns left
  double cant_mm = 0;
};

struct PatchContext {
  bool on_bench = false;
  const ContactZone& zone;
  const Patch& patch;
  const MaterialPair& material;
  double friction = 0.3;
  Motion motion;
  CreepageRequest creepage;
  const WheelsetPose& pose;
  const Locator* locator = nullptr;  ///< null on a bench
  Inputs inputs;
  const std::vector<ContactZone>* zones = nullptr;  ///< of both wheels, `zone` among them; null on a bench
};

struct WheelsetContext {
  const Locator& locator;
  LateralReference reference = LateralReference::axle;
  const WheelsetPose& pose;
  Motion motion;
  WheelLoads load;
  Inputs inputs;
};

/// Implement describe() and the run() of your scope. Objects are used from several threads at once: run() is const.
class Analysis {
 public:
  virtual ~Analysis() = default;
  virtual Description describe() const = 0;
  /// Fields lie on the patch's grid (context.patch.grid). What takes longer than a few milliseconds calls progress.check()
  /// in its loops, which ends it when the user asks to stop.
  /// @throws Error; any exception becomes a caution on this analysis and the others go on.
  virtual AnalysisResult run(const PatchContext&, const Parameters&, const Progress&) const;
  virtual AnalysisResult run(const WheelsetContext&, const Parameters&, const Progress&) const;
};

/// Defaults of the description with what was asked put over them.
/// @throws InputError (unknown_key, wrong_type, out_of_range, unknown_name) naming the parameter and the nearest known one.
Parameters checked_parameters(const Description&, const std::map<std::string, ParameterValue>& asked);

}  // namespace runband

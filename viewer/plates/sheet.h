// What every plate shares: ground, title block, contacts chosen by name.
#pragma once

#include <string>
#include <vector>

#include "viewer/plates/plate.h"
#include "viewer/plot/picture.h"
#include "viewer/plot/plot.h"

namespace runband {

struct TitleBlock {
  std::string title;
  std::vector<std::string> left;   ///< lines under the title
  std::vector<std::string> right;  ///< lines at the right edge
};

/// What the title block says of a case: state and load at the left, method, version and checksum at the right.
TitleBlock title_block(const Case&, const Plate&, const std::string& state);
/// "lateral 3.25 mm at the axle centre, yaw 0.0 mrad".
std::string state_text(const Solution&);

/// Draws ground-less title block along the foot of the page; returns what is left of the page above it, inside the
/// margins.
plot::Box draw_title_block(const TitleBlock&, plot::Canvas&, const plot::Theme&, const plot::Style&);

plot::PictureOptions picture_options(const Plate&, const Case&);

/// "left tread".
std::string contact_name(const Contact&);
/// Indices of the loaded contacts whose name begins with `wanted` or is its side or zone; all if empty.
/// @throws InputError (unknown_name) naming those there are.
std::vector<std::size_t> chosen_contacts(const Solution&, const std::string& wanted);
/// The one of the chosen with the highest peak pressure.
std::size_t hardest_contact(const Solution&, const std::string& wanted);

void draw_patch_plate(const Solution&, const Plate&, plot::Canvas&);
void draw_section_plate(const Solution&, const Plate&, plot::Canvas&);
/// A curve of an analysis, of every contact that has it. @throws InputError (unknown_name) naming those there are.
void draw_curve_plate(const Solution&, const Plate&, plot::Canvas&);
void draw_traverse_plate(const Traverse&, const Plate&, plot::Canvas&);
void draw_scene_plate(const Solution&, const Plate&, const std::filesystem::path& out);

/// The pressure of a patch as a heat map in mm of the contact frame.
plot::HeatMap pressure_map(const Patch&, double highest_MPa);
/// The same of a contact: where Hertz's ellipse is the patch, its edge cuts the cells.
plot::HeatMap pressure_map(const Contact&, double highest_MPa);
/// Any field of a contact as a heat map; nothing where there is no contact. @param steps 0: flowing
plot::HeatMap field_heat_map(const Contact&, const Field&, plot::ColourMap, const plot::Range&, int steps = 0);
/// Letter of a contact's detail view: L or R, B on the bench.
std::string detail_letter(const Contact&);
/// In capitals, for the label over a figure.
std::string contact_label(const Contact&);
/// Wheel and rail section of one side as they stand at this contact: (distance from the track's centre line, height above
/// the running surface), mm; hatched bodies and outlines, no axes set.
plot::Plot section_plot(const Solution&, const ContactZone&, const plot::Theme&, double chord_error_mm = 0.01);
/// The ellipse's outline in the contact frame.
plot::Line ellipse_line(const HertzEllipse&);

}  // namespace runband

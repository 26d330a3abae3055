// Every figure this room can draw.
#pragma once

#include <glint/report/heat_map.h>
#include <glint/report/line_plot.h>
#include <glint/report/png.h>
#include <glint/report/point_view.h>
#include <glint/report/zone_map.h>

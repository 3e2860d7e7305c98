"""Short notes on the headings of the blank intake workbook, by field."""

from __future__ import annotations

STUDY = {
    "part_number": "As on the drawing.",
    "part_name": "What the part is called.",
    "supplier": "Who made the parts.",
    "lot": "Lot or batch the parts come from.",
    "date": "Day of measurement, such as 2026-03-12.",
    "prepared_by": "Who answers questions about this study.",
    "requirement": "The smallest acceptable index, such as 1.33. A characteristic may have its own.",
    "requirement_on": "The index held against the requirement: Ppk (total spread) or Cpk (spread within subgroups).",
    "confidence": "How sure each bound has to be; 95 % where nothing else is agreed.",
    "stage": "preliminary: before series production. ongoing: from running production.",
    "note": "Anything the reader should know: tool change, new batch, sorted parts ...",
}

CHARACTERISTICS = {
    "id": "Needed. Short and different for each characteristic, such as D12. It becomes the heading of its column of "
    "values.",
    "name": "What is measured, such as Bore diameter.",
    "unit": "Unit of the limits and of the values, such as mm.",
    "nominal": "Nominal or target value, if there is one.",
    "lower": "Lower specification limit as a value, not as a deviation. Leave empty if there is none: a flatness has "
    "no lower limit.",
    "upper": "Upper specification limit as a value, not as a deviation. Leave empty if there is none.",
    "natural_lower": "A bound no value can pass, such as 0 for a flatness. It is no specification.",
    "natural_upper": "A bound no value can pass, such as 100 for a share in percent. It is no specification.",
    "kind": "What kind of characteristic it is. It narrows the shapes considered before any value is looked at; see "
    "the sheet Kinds and models.",
    "model": "Leave empty to let the data decide among the models for the kind. Name one only with a reason.",
    "requirement": "Only where it differs from the requirement of the study.",
    "subgroup_size": "Parts measured together, such as 5. Not needed where the measurements have a column Subgroup.",
    "resolution": "Smallest step the gauge shows, such as 0.001.",
    "critical_class": "How important it is, such as critical.",
    "claimed_index": "The index that the sender states, such as Cpk.",
    "claimed_value": "Its value as the sender states it.",
    "note": "Anything the reader should know of this characteristic.",
}

MEASUREMENTS = {
    "subgroup": "Number or name of the subgroup a row belongs to. Leave empty if there are none.",
    "time": "When the part was made or measured. Rows stand in the order of production.",
    "stream": "Cavity, spindle, head or station the part comes from.",
    "leave_out": "Any text keeps the row out of the study and is shown as the reason. Leave empty for a valid row.",
}

GAUGE = {
    "characteristic": "Id of the characteristic that was measured.",
    "part": "Number or name of the part that was measured again and again.",
    "appraiser": "Who measured.",
    "trial": "1 for the first time this part was measured by this person, 2 for the second ...",
    "value": "The reading, in the unit of the characteristic.",
}

COUNTS = {
    "category": "Kind of defect, such as Scratch.",
    "count": "How often it was found.",
    "period": "Day, week or month of the count.",
    "inspected": "How many parts were looked at.",
    "cost": "Cost of these defects, in one currency throughout.",
}

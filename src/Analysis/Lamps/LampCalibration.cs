namespace Lampwarden.Analysis.Lamps;

/// <summary>What was measured on one lamp. NaN where a value was not taken.</summary>
/// <param name="ColdOhms">Cold resistance less the leads, in ohms; the lamp off for ten minutes.</param>
/// <param name="RoomCelsius">Room temperature at that time.</param>
/// <param name="ShortedAmps">Line current with this lamp alone and the output shorted, after two seconds.</param>
/// <param name="ShortedVolts">Mains at that time.</param>
/// <param name="DimAmps">Optional third point: line current with this lamp alone and a known resistor as the unit.</param>
/// <param name="DimVolts">Volts across the lamp at that time, 2 to 50 % of its rating.</param>
public sealed record LampCalibration(
    double ColdOhms, double RoomCelsius, double ShortedAmps, double ShortedVolts, double DimAmps = double.NaN, double DimVolts = double.NaN);

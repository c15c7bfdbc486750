namespace Pipeline.Fitting;

/// <summary>A parameter of a fitted family with its profile-likelihood interval of 68 %: counting and background only.</summary>
/// <param name="Name">Of the parameter.</param>
/// <param name="Unit">Empty where it has none.</param>
/// <param name="Value">Best fit.</param>
/// <param name="Low">Lower end; the bound of the search where the data do not exclude it.</param>
/// <param name="High">Upper end, likewise.</param>
public sealed record ShapeParameter(string Name, string Unit, double Value, double Low, double High);

/// <summary>A family that was fitted.</summary>
/// <param name="Family">Name.</param>
/// <param name="Deviance">Of the counts.</param>
/// <param name="Parameters">Effective number; a spline's prior takes some.</param>
/// <param name="Criterion">Information criterion; smaller is better.</param>
/// <param name="Converged">Whether the search ended at a minimum; there may be trouble with it all the same.</param>
/// <param name="Chosen">Whether its spectrum is the one given.</param>
/// <param name="Trouble">Why it could not be chosen; null where it could.</param>
public sealed record ShapeChoice(string Family, double Deviance, double Parameters, double Criterion, bool Converged, bool Chosen, string? Trouble);

namespace GainMargin;

/// <summary>How far a search has come.</summary>
/// <param name="Stage">What is being done.</param>
/// <param name="Fraction">Share of the range that is settled, from 0 to 1.</param>
/// <param name="Decompositions">Eigenvalue decompositions so far.</param>
public readonly record struct FinderProgress(string Stage, double Fraction, int Decompositions);

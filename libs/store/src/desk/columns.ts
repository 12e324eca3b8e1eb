import { DataTypes } from 'sequelize';

// Sequelize writes the field's name into the object it is given, so that each column needs an object of its own.

/** A text column; not null unless `maybe`. */
export const text = (maybe?: 'maybe') => ({ type: DataTypes.TEXT, allowNull: maybe === 'maybe' });
/** A UUID column; not null unless `maybe`. */
export const uuid = (maybe?: 'maybe') => ({ type: DataTypes.UUID, allowNull: maybe === 'maybe' });
/** An instant; not null unless `maybe`. */
export const instant = (maybe?: 'maybe') => ({ type: DataTypes.DATE, allowNull: maybe === 'maybe' });
/** A whole number, not null. */
export const whole = () => ({ type: DataTypes.INTEGER, allowNull: false });
/** The row's number, given by the table. */
export const rowNumber = () => ({ type: DataTypes.INTEGER, primaryKey: true, autoIncrement: true });
